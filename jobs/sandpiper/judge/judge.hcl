# Question: are the modes that are found in a flight of the Sandpiper those of the frame that was flown?
# Expected: the command in this folder sets what is found here against the truth beside the recording.

job "sandpiper-judge" {
  about = "Modes found in a recording, to be set against its truth"
}

setting "recording" {
  value = "../flights/hover-03.csv.gz"
  about = "a flight written by fly"
}

stage "identify" "inflight" {
  file    = setting.recording
  window  = ["14 s", "72 s"]
  columns = { time = "time_us", roll = "gx", pitch = "-gy", yaw = "-gz" }
  units   = { gx = "deg/s", gy = "deg/s", gz = "deg/s" }
  rotors  = { fl = "rpm_1", fr = "rpm_2", rl = "rpm_3", rr = "rpm_4" }
}
