x q;
/* never closed */ y q;
/*/ z q;
