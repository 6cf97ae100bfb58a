π = τ + ℇ; ϕ = φ; _x1 = été; // to the end of the line */
/* over
lines */ $0; $00; #pragma raw // text "
pragma   more \
@cantle.dense M "quoted" // raw
x q;
a<<=b; a**=b; a>>b; a**b;
