bool a = true;
bit b; bit[4] c = "0101"; uint[n + 1] d; angle e = pi;
duration f = 10ns; stretch g; complex h; complex[float[32]] i = 1 + 2im;
const float j = 1;
array[bool, 2, 1] k = {{true}, {false}};
