#include "describe/run.hpp"

int main(int argc, char** argv) {
  return tambour::tools::guarded_main(argc, argv, "tambour-describe", tambour::tools::describe::run);
}
