package schema

// LightSpeed is c in m/s, exact (SI).
const LightSpeed = 299792458.0
