

OPENQASM   3.0 ;
include"stdgates.inc";
// Heat along three trays.


@cantle.matrix   symmetric
array[ complex[float [64]],2 , 2] bench={{2,-1.5im},
   {1/sqrt( 2 ),pi**2} ,};
array[int, 2, 2] flat = {{1,2},{3,4}};
const  int[32]n=- 3 ;   // three
gate twist(a,b)t,u{ctrl@ rx(a/2)t,u;
  negctrl( 2 ) @ pow(1/2)@ x t,u , t;


    /* a note */ gphase(-a) ;
      // the last
}
gate nothing q{
}
gate short q{h q;}
qubit[ 3 ]tray;bit[3] c;
let ends=tray[ 0 : 2 : 2 ]++tray[{0,-1}];
if(theta>1&&!(n==3)){x spare;}
else if (true)
y spare;
else{z spare;
w spare;}
for uint i in[0:2]{twist(i)tray[i],spare;
}
for int i in {1,2 , 3}
x tray[ i ];
while(n<4){continue;}
switch(n){case 0,1{x spare;}
default{break;
}}
measure spare->c[1];c[0]=measure spare;
call(1,
2,
3) a,
b;
pragma   note for the machine
cal { play   { } }
def f(int a,qubit[2] q)->bit{return measure q[0];}
box[ 10ns ]{delay[ 1us ]q;}
x=int[8]( y )+a[0][1]*-b;
{x q;
{y q;
}}
