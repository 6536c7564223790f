#pragma once
// Writing a whole text or byte string to a file.

#include <fstream>
#include <string>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>

namespace tepor::detail {

/// @throws Error bad_file  the file cannot be opened or written to its end
inline void write_file(const std::string& path, const std::string& bytes) {
    std::ofstream out(path, std::ios::binary | std::ios::trunc);
    out.write(bytes.data(), static_cast<std::streamsize>(bytes.size()));
    out.close();
    if (!out)
        throw Error(ErrorCode::bad_file, path,
                    text("cannot write \"", path, "\"; check that the folder exists and may be written to"));
}

} // namespace tepor::detail
