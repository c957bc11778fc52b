"""Fields of the tables of Camtrap DP 1.0.2, in order, with the mark of those that every row must fill."""

from __future__ import annotations

VERSIONS = ("1.0", "1.0.1", "1.0.2")
"""Versions with these fields and no others."""

MISSING = ("", "NA", "NaN", "nan")

DEPLOYMENTS = {
    "deploymentID": True, "locationID": False, "locationName": False, "latitude": True, "longitude": True,
    "coordinateUncertainty": False, "deploymentStart": True, "deploymentEnd": True, "setupBy": False, "cameraID": False,
    "cameraModel": False, "cameraDelay": False, "cameraHeight": False, "cameraDepth": False, "cameraTilt": False,
    "cameraHeading": False, "detectionDistance": False, "timestampIssues": False, "baitUse": False, "featureType": False,
    "habitat": False, "deploymentGroups": False, "deploymentTags": False, "deploymentComments": False,
}  # fmt: skip

MEDIA = {
    "mediaID": True, "deploymentID": True, "captureMethod": False, "timestamp": True, "filePath": True,
    "filePublic": True, "fileName": False, "fileMediatype": True, "exifData": False, "favorite": False,
    "mediaComments": False,
}  # fmt: skip

OBSERVATIONS = {
    "observationID": True, "deploymentID": True, "mediaID": False, "eventID": False, "eventStart": True,
    "eventEnd": True, "observationLevel": True, "observationType": True, "cameraSetupType": False,
    "scientificName": False, "count": False, "lifeStage": False, "sex": False, "behavior": False, "individualID": False,
    "individualPositionRadius": False, "individualPositionAngle": False, "individualSpeed": False, "bboxX": False,
    "bboxY": False, "bboxWidth": False, "bboxHeight": False, "classificationMethod": False, "classifiedBy": False,
    "classificationTimestamp": False, "classificationProbability": False, "observationTags": False,
    "observationComments": False,
}  # fmt: skip

LEVELS = ("media", "event")
TYPES = ("animal", "human", "vehicle", "blank", "unknown", "unclassified")
ZONE_FIELDS = ("locationName", "locationID", "habitat")
GROUPS = "deploymentGroups:"
"""What ``logs.columns.zone`` begins with where a key of ``deploymentGroups`` carries the zone."""
