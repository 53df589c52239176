#include "analyse/run.hpp"

int main(int argc, char** argv) {
  return tambour::tools::guarded_main(argc, argv, "tambour-analyse", tambour::tools::analyse::run);
}
