#include "phantom/run.hpp"

int main(int argc, char** argv) {
  return tambour::tools::guarded_main(argc, argv, "tambour-phantom", tambour::tools::phantom::run);
}
