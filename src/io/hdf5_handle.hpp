// An identifier of the HDF5 library that closes itself, and the lock that the library needs.
#pragma once

#include <hdf5.h>

#include <mutex>
#include <utility>

namespace clickwise::io {

// Debian's serial library is not built for threads.
inline std::recursive_mutex& hdf5_mutex() {
  static std::recursive_mutex mutex;
  return mutex;
}

// Held through every call; keeps the library from printing its own errors.
class Hdf5Lock {
public:
  Hdf5Lock() : hold_(hdf5_mutex()) { H5Eset_auto2(H5E_DEFAULT, nullptr, nullptr); }

private:
  std::lock_guard<std::recursive_mutex> hold_;
};

class Hdf5Handle {
public:
  Hdf5Handle() = default;
  Hdf5Handle(hid_t id, herr_t (*close)(hid_t)) : id_(id), close_(close) {}
  ~Hdf5Handle() { reset(); }
  Hdf5Handle(Hdf5Handle&& other) noexcept
      : id_(std::exchange(other.id_, H5I_INVALID_HID)), close_(other.close_) {}
  Hdf5Handle& operator=(Hdf5Handle&& other) noexcept {
    reset();
    id_ = std::exchange(other.id_, H5I_INVALID_HID);
    close_ = other.close_;
    return *this;
  }

  explicit operator bool() const { return id_ >= 0; }
  hid_t id() const { return id_; }
  void reset() { close(); }
  // Whether it went well, as closing a file need not.
  bool close() {
    const hid_t id = std::exchange(id_, H5I_INVALID_HID);
    return id < 0 || close_(id) >= 0;
  }

private:
  hid_t id_ = H5I_INVALID_HID;
  herr_t (*close_)(hid_t) = nullptr;
};

}  // namespace clickwise::io
