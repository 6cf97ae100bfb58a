// Calibration of a pair of moisture sensors. The scenario and its numbers are
// invented for this demo.
//
// The response of the pair was fitted to a unitary matrix, then printed with
// four digits. As it stands it is only nearly unitary; the linter says by how
// much and offers the nearest matrix that is.
OPENQASM 3.0;
include "stdgates.inc";

@cantle.matrix unitary
array[complex[float[64]], 4, 4] response = {
  {-0.2792 + 0.1166im, -0.0317 - 0.5041im, -0.2267 + 0.2168im,  0.6648 - 0.336im},
  { 0.0003 - 0.6861im, -0.2059 - 0.2872im,  -0.471 - 0.2046im, -0.3087 - 0.213im},
  { 0.4415 + 0.3412im,  0.2489 - 0.0241im, -0.6531 + 0.3936im, -0.204 + 0.0552im},
  { 0.1844 - 0.3038im, -0.1406 + 0.7333im, -0.2036 + 0.1224im, 0.4633 - 0.2124im}
};

@cantle.dense response within 1e-8
gate calibrate wet, dry {}

qubit[2] sensor;
calibrate sensor[0], sensor[1];
