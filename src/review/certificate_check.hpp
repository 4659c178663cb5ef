// Does a certificate prove what it claims? Judged from the offset problem and the certificate alone, by slow and plain arithmetic.
//
// Every step is checked to be allowed and is carried out here; every minimum is found here, over admissible differences only. Whole numbers
// of 64 bits throughout: what would not fit is a finding and not a wrap-around.
#pragma once

#include <cstdint>
#include <optional>
#include <string>

#include "base/diagnostic.hpp"
#include "plan/certificate.hpp"
#include "plan/offset_problem.hpp"

namespace entrain::review {

struct CertificateReview {
  bool accepted = false;                   // no findings: the claims hold
  bool proves_infeasible = false;          // no assignment of labels is admissible
  std::optional<std::int64_t> bound;       // no assignment costs less than this; absent where the certificate cannot be evaluated
  std::optional<std::int64_t> value;       // cost of the answer the certificate holds, recomputed; absent without an admissible answer
  bool proves_optimal = false;             // value == bound
  Diagnostics findings;                    // what is wrong with it
};

// `source` names the certificate in findings.
CertificateReview check_certificate(const plan::OffsetProblem& problem, const plan::Certificate& certificate, const std::string& source);

}  // namespace entrain::review
