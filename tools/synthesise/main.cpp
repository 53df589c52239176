#include "synthesise/run.hpp"

int main(int argc, char** argv) {
  return tambour::tools::guarded_main(argc, argv, "tambour-synthesise", tambour::tools::synthesise::run);
}
