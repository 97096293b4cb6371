/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The line-scan camera: what one exposure of the slit collects, its noise and its coding. Owns the crossings
 * it films; one thread.
 */
#pragma once

#include "samples/sim/motion.h"
#include "samples/sim/scene.h"

typedef struct {
    const SimEntry *entry;
    int passage;
    double at_s; /* true crossing of the front tyre, from the epoch */
    SimMotion *motion;
    double gain_m; /* of the whole throw */
} SimCrossing;

typedef struct SimCamera SimCamera;

SimCamera *sim_camera_new(const SimScenario *scenario);
void sim_camera_free(SimCamera *camera);
const SimScene *sim_camera_get_scene(const SimCamera *camera);
/* Crossings, nearest to the camera first. */
const GArray *sim_camera_get_crossings(const SimCamera *camera);

int sim_camera_channels(const SimCamera *camera);
/* True time of the middle of a scan's exposure, s from the epoch. Scan 0 begins at the epoch. */
double sim_camera_middle(const SimCamera *camera, int64_t scan);
/* What the camera writes as that scan's stamp, ns: by its own clock, which holds its rate for the nominal
 * one. */
int64_t sim_camera_stamp(const SimCamera *camera, int64_t scan);

/* The exposure in linear light: rows times channels values, without noise. */
void sim_camera_expose(SimCamera *camera, int64_t scan, float *light);
/* Noise and coding: as many samples, 0 to 255 or to 65535. */
void sim_camera_read(SimCamera *camera, int64_t scan, const float *light, uint16_t *samples);

/* Whether something nearer hides a point of a rider's plane when it comes to the slit at true time t. */
gboolean sim_camera_hidden(SimCamera *camera, const SimCrossing *crossing, double u_m, double h_m,
                           double t_s);
/* When the slit reads a place of the bicycle (0 = foremost point) at a height. */
double sim_crossing_read(const SimCamera *camera, const SimCrossing *crossing, double u_m, double h_m);
