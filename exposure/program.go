package exposure

// Program is the program's name and version, as every result bears them.
const Program = "standclear 0.1.0"
