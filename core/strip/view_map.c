/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/view_map.h"

bool
hw_view_later_left(HwSide travel, bool mirrored)
{
    return (travel == HW_SIDE_RIGHT) != mirrored;
}

double
hw_view_map_x(const HwViewMap *map, double cell)
{
    double along_px = (cell - map->first_cell) / map->cells_per_px;
    return map->later_left ? map->width_px - along_px : along_px;
}

double
hw_view_map_cell(const HwViewMap *map, double x_px)
{
    double along_px = map->later_left ? map->width_px - x_px : x_px;
    return map->first_cell + along_px * map->cells_per_px;
}

double
hw_view_map_y(const HwViewMap *map, double row)
{
    return (row - map->first_row) / map->rows_per_px;
}

double
hw_view_map_row(const HwViewMap *map, double y_px)
{
    return map->first_row + y_px * map->rows_per_px;
}

double
hw_view_map_last_cell(const HwViewMap *map)
{
    return map->first_cell + map->width_px * map->cells_per_px;
}

HwViewMap
hw_view_map_zoomed(const HwViewMap *map, double x_px, double cells_per_px)
{
    HwViewMap zoomed = *map;
    double along_px = map->later_left ? map->width_px - x_px : x_px;
    zoomed.cells_per_px = cells_per_px;
    zoomed.first_cell = map->first_cell + along_px * (map->cells_per_px - cells_per_px);
    return zoomed;
}
