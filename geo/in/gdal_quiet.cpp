#include "geo/in/gdal_quiet.hpp"

#include <cpl_conv.h>
#include <cpl_error.h>
#include <gdal_priv.h>

#include <mutex>

namespace entrain::geo {
namespace {

void CPL_STDCALL handle(CPLErr kind, CPLErrorNum, const char* message) {
  auto* quiet = static_cast<GdalQuiet*>(CPLGetErrorHandlerUserData());
  if (quiet != nullptr) quiet->collect(kind >= CE_Failure, message);
}

}  // namespace

GdalQuiet::GdalQuiet() {
  static std::once_flag registered;
  std::call_once(registered, [] { GDALAllRegister(); });
  CPLPushErrorHandlerEx(handle, this);
  CPLErrorReset();
}

GdalQuiet::~GdalQuiet() { CPLPopErrorHandler(); }

void GdalQuiet::collect(bool is_error, const char* message) {
  if (is_error && m_errors.size() < 20) m_errors.emplace_back(message);
}

std::string GdalQuiet::errors() const {
  std::string text;
  for (const std::string& message : m_errors) text += (text.empty() ? "" : "; ") + message;
  return text;
}

}  // namespace entrain::geo
