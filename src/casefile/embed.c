/* Host program: writes case files out as C, so that the library needs no files at run time.
 * Usage: embed OUT.c FILE.ini...   The name of each is that of its file. */
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static int write_bytes(FILE *out, const char *path, int index) {
    enum { PER_LINE = 20 };
    FILE *in = fopen(path, "rb");
    if (!in) {
        perror(path);
        return 0;
    }
    fprintf(out, "static const char text_%d[] = {", index);
    long count = 0;
    for (int byte; (byte = fgetc(in)) != EOF; count++)
        fprintf(out, "%s'\\x%02x',", count % PER_LINE == 0 ? "\n    " : " ", (unsigned)byte);
    fprintf(out, "\n    '\\0'};\n");
    int done = !ferror(in) && count > 0;
    fclose(in);
    if (!done)
        fprintf(stderr, "%s: cannot be read, or is empty\n", path);
    return done;
}

/* The file's name without folder and ending. */
static void write_name(FILE *out, const char *path) {
    const char *slash = strrchr(path, '/'), *name = slash ? slash + 1 : path, *dot = strrchr(name, '.');
    fprintf(out, "%.*s", dot ? (int)(dot - name) : (int)strlen(name), name);
}

static int write_all(FILE *out, char **paths, int count) {
    int done = 1;
    fprintf(out, "/* Written by embed from the case files named below. */\n#include \"internal.h\"\n\n");
    for (int i = 0; i < count && done; i++)
        done = write_bytes(out, paths[i], i);
    fprintf(out, "\nconst struct case_text bw_case_texts[] = {\n");
    for (int i = 0; i < count; i++) {
        fprintf(out, "    {\"");
        write_name(out, paths[i]);
        fprintf(out, "\", text_%d},\n", i);
    }
    fprintf(out, "};\nconst size_t bw_case_texts_count = %d;\n", count);
    return done;
}

int main(int count, char **arguments) {
    if (count < 3) {
        fprintf(stderr, "usage: embed OUT.c FILE.ini...\n");
        return EXIT_FAILURE;
    }
    FILE *out = fopen(arguments[1], "wb");
    if (!out) {
        perror(arguments[1]);
        return EXIT_FAILURE;
    }
    int done = write_all(out, arguments + 2, count - 2);
    if (fclose(out) != 0 || !done) {
        remove(arguments[1]);
        return EXIT_FAILURE;
    }
    return EXIT_SUCCESS;
}
