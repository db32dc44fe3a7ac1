/* The page of an instrument's check. Private to core/report. */
#ifndef BANDTALLY_REPORT_CHECK_PRIVATE_H
#define BANDTALLY_REPORT_CHECK_PRIVATE_H

#include "report-private.h"

G_BEGIN_DECLS

/* (transfer full): what was checked, with what. */
char *bt_report_check_name (const BtInstrumentCheck *check);
/* The whole page; keeps neither @check nor @spectrum. */
BtFlow *bt_report_check_flow (PangoContext *context, const BtInstrumentCheck *check, BtSpectrum *spectrum, const char *date, double width);
/* The standard's curve over wavelength, with a mark where something was found; copies what it draws. */
BtBlock *bt_report_check_figure_new (PangoContext *context, const BtInstrumentCheck *check, BtSpectrum *spectrum, double width);

G_END_DECLS

#endif
