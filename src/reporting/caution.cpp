#include "pathvet/reporting/caution.hpp"

namespace pathvet {

const char* caution() {
  return "pathvet looks at kinematics alone, and at those of a nominal model: it does not see collisions, "
         "payload, "
         "calibration error, cables or people. A clear verdict is no permission to run. Whether and how the "
         "real arm "
         "may move is decided by the risk assessment of the site (ISO 12100, ISO 10218-2), local rules and "
         "the "
         "responsible qualified person; make first runs at reduced speed (at most 250 mm/s at the TCP, ISO "
         "10218-1) "
         "with the protective measures in place.";
}

}  // namespace pathvet
