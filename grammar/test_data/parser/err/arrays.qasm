array[float, 2, 2] a = {{1, 2 3}, {4 5}};
array[float, 2, 2] b = {{1, 2}, {3, 4};
array[float] c;
x q;
