#include "base/near_name.hpp"
#include "standards/embedded.hpp"

namespace entrain::standards {

Result<DesignStandard> find_standard(const std::string& id, const std::string& where) {
  if (const auto text = embedded_standard(id)) return read_standard(*text, id + ".toml");
  std::string known;
  for (const std::string_view other : embedded_standard_ids()) known += (known.empty() ? "" : ", ") + std::string(other);
  return failure(error(where, "unknown design standard " + printable(id), "one of " + known, did_you_mean(id, embedded_standard_ids(), "Name one of these")));
}

}  // namespace entrain::standards
