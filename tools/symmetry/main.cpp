#include "symmetry/run.hpp"

int main(int argc, char** argv) {
  return tambour::tools::guarded_main(argc, argv, "tambour-symmetry", tambour::tools::symmetry::run);
}
