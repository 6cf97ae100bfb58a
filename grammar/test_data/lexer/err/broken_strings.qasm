"01_"; "a
'tab	inside'; "";
