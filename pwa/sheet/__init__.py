"""The customer's sheet as a PDF: what it says (`content`), where it stands (`layout`), how it is drawn (`draw`).

    data = sheet_of(job, assessment, display, Firm("…"), offer=offer, date="2031-05-04")     pwa.sheet.content
    pdf = draw_sheet(data)                                                                   pwa.sheet.draw

`content` and `data` need nothing but the core. `draw` imports fpdf2 and fontTools: import it only when a sheet is made.
"""
