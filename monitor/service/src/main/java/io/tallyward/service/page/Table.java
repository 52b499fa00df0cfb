package io.tallyward.service.page;

/** A table that scrolls sideways on a narrow screen, and can be reached by keyboard to do so. */
final class Table {

    private final Markup html;

    private Table(Markup html) {
        this.html = html;
    }

    /** Opens a table; its first column names the rows. */
    static Table open(Markup html, String caption, String... headings) {
        html.open("div", "class", "scroll", "role", "region", "aria-label", caption, "tabindex", "0");
        html.open("table").leaf("caption", caption).open("thead").open("tr");
        for (String heading : headings) {
            html.leaf("th", heading, "scope", "col");
        }
        html.close().close().open("tbody");
        return new Table(html);
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

    void close() {
        html.close().close().close();
    }
}
