x q; ` x $ 0; #nothing
é; a\b;
