package io.tallyward.service.page;

/** A table that scrolls sideways on a narrow screen, and can be reached by keyboard to do so. */
final class Table {

    private final Markup html;
    private final int columns;

    private Table(Markup html, int columns) {
        this.html = html;
        this.columns = columns;
    }

    /** Opens a table; its first column names the rows. */
    static Table open(Markup html, String caption, Column... columns) {
        html.open("div", "class", "scroll", "role", "region", "aria-label", caption, "tabindex", "0");
        html.open("table").leaf("caption", caption).open("thead").open("tr");
        for (Column column : columns) {
            html.leaf("th", column.heading(), "scope", "col", "class", column.numeric() ? "number" : null);
        }
        html.close().close().open("tbody");
        return new Table(html, columns.length);
    }

    /** Starts a row. */
    Table row(String name) {
        html.open("tr").leaf("th", name, "scope", "row");
        return this;
    }

    Table number(String figure) {
        html.leaf("td", figure, "class", "number");
        return this;
    }

    Table text(String text) {
        html.leaf("td", text);
        return this;
    }

    /** A cell with anything in it. */
    Table cell(Runnable contents) {
        html.open("td");
        contents.run();
        html.close();
        return this;
    }

    void endRow() {
        html.close();
    }

    /** A sentence about the row before, below it and across all columns. */
    void remark(String sentence) {
        html.open("tr", "class", "remark").open("td", "colspan", Integer.toString(columns));
        html.leaf("p", sentence).close().close();
    }

    void close() {
        html.close().close().close();
    }

    /**
     * A column.
     *
     * @param heading what stands above it
     * @param numeric whether its cells are figures, to be aligned at the right
     */
    record Column(String heading, boolean numeric) {

        static Column text(String heading) {
            return new Column(heading, false);
        }

        static Column number(String heading) {
            return new Column(heading, true);
        }
    }
}
